// Demonstration: warming up a heated press platen under an on/off thermostat: time to reach the set point, overshoot, energy
// used, the balance of the run, and a strip of the temperatures over time.

#include "inputs.hpp"
#include "pictures.hpp"
#include <algorithm>
#include <cmath>
#include <string>
#include <tepor/output/text.hpp>
#include <tepor/tepor.hpp>

using namespace tepor;

namespace {

/// On below the lower edge of the band, off above the upper one.
class Thermostat {
  public:
    Thermostat(double set_point, double band, double power)
        : low_(set_point - band), high_(set_point + band), power_(power) {}
    double operator()(double reading) {
        if (reading < low_) on_ = true;
        if (reading > high_) on_ = false;
        return on_ ? power_ : 0.0;
    }

  private:
    double low_, high_, power_;
    bool on_ = false;
};

/// A row of the strip: S the sensor, C the coldest place of the working face, > the set point.
std::string strip(double sensor, double coldest, double set_point, double low, double high) {
    const int width = 60;
    std::string row(width + 1, ' ');
    const auto column = [&](double T) {
        return static_cast<std::size_t>(std::clamp((T - low) / (high - low), 0.0, 1.0) * width);
    };
    row[column(set_point)] = '|';
    row[column(coldest)] = 'C';
    row[column(sensor)] = 'S';
    return row;
}

} // namespace

int main() {
    const double set_point = 180.0;
    const double band = 1.0;
    const double full_power = 6000.0;
    fmt::print("A press platen warms up, for a depth of 0.40 m\n\n");
    demo::print({
        {"platen", "0.60 x 0.06 m, steel", "chosen for the demonstration"},
        {"conductivity, density, specific heat", "45 W/(m K), 7850 kg/m3, 490 J/(kg K)",
         "carbon steel near 100 degC, common practice, no source"},
        {"heaters", "5 rods of 16 mm, 6000 W together", "chosen for the demonstration"},
        {"rods", "16 W/(m K), 7900 kg/m3, 500 J/(kg K)",
         "stainless sheath and magnesia as one, common practice, no source"},
        {"film on the working face", "25 W/(m2 K), air of 22 degC",
         "natural draught and radiation together, common practice, no source"},
        {"other faces", "adiabatic", "insulating boards, common practice, no source"},
        {"set point, band", "180 +- 1 degC", "the duty asked for"},
        {"sensor", "5 mm under the middle of the working face", "chosen for the demonstration"},
    });

    const Parameter power{"heater power", 0.0};
    Section section;
    section.add("platen", rectangle({0.0, 0.0}, {0.60, 0.06}));
    for (const double x : {0.06, 0.18, 0.30, 0.42, 0.54}) section.add("heater", circle({x, 0.03}, 0.008));
    section.face("working face", {0.0, 0.06}, {0.60, 0.06});
    Body platen{triangulate<Triangle<2>>(section, {.size = 0.010}, Planar{.depth = 0.40})};
    platen.in("platen", Material{.conductivity = 45.0, .density = 7850.0, .specific_heat = 490.0});
    platen.in("heater", Material{.conductivity = 16.0, .density = 7900.0, .specific_heat = 500.0});
    platen.in("heater", Generation{.total = power});
    platen.on("working face", Film{.coefficient = 25.0, .fluid = 22.0});

    March march{platen, initial(22.0), Theta{.theta = 0.5, .step = 2.0}};
    const Probe sensor = march.watch(at({0.30, 0.055}));
    const Probe coldest = march.watch(coldest_on("working face"));
    const Input heater = march.drive(power);
    const Integral used = march.integral(generated_in("heater"));
    const Integral given = march.integral(heat_out_through("working face"));
    const Peak peak = march.peak(at({0.30, 0.055}));
    const double before = march[stored_in("platen")] + march[stored_in("heater")];

    fmt::print("\n{:>8}  {:>9}  {:>9}  {:>6}   22 degC{:>52} degC\n", "time [s]", "sensor", "coldest", "power", 200);
    Record record({at({0.30, 0.055}).named("sensor"), coldest_on("working face").named("coldest of the face"),
                   generated_in("heater").named("heater power")});
    Thermostat thermostat(set_point, band, full_power);
    double reached = 0.0;
    double uneven = 0.0;
    Index switches = 0;
    double last = -1.0;
    double by_hand = 0.0;
    while (march.time() < 3600.0) {
        const double now = thermostat(march[sensor]);
        if (now != last) ++switches;
        last = now;
        by_hand += now * 2.0;
        march.set(heater, now);
        if (const Step step = march.advance(); !step.ok()) {
            fmt::print("stopped: {}\n", text_of(step.verdict()));
            return 1;
        }
        if (reached == 0.0 && march[sensor] >= set_point) {
            reached = march.time();
            uneven = march[sensor] - march[coldest];
        }
        record.add(march.time(), {march[sensor], march[coldest], now});
        if (std::fmod(march.time(), 180.0) == 0.0)
            fmt::print("{:>8.0f}  {:>9.1f}  {:>9.1f}  {:>6.0f}   {}\n", march.time(), march[sensor], march[coldest],
                       now, strip(march[sensor], march[coldest], set_point, 22.0, 200.0));
    }
    demo::picture("platen_warm_up", strip_svg(record, {.title = "Platen under an on/off thermostat at 180 degC"}));
    demo::picture("platen_after_an_hour", map_svg(march.field(), {.title = "Platen after an hour, depth 0.4 m"}));
    const double stored = march[stored_in("platen")] + march[stored_in("heater")] - before;
    fmt::print("\nset point reached after {:.0f} s, the coldest place of the working face then {:.1f} K behind\n",
               reached, uneven);
    fmt::print("highest at the sensor {:.2f} degC at {:.0f} s, an overshoot of {:.2f} K over the set point\n",
               march[peak].value, march[peak].time, march[peak].value - set_point);
    fmt::print("the heaters were switched {} times in the hour\n", switches);
    const Balance total = march.total();
    fmt::print("\nThe hour, in kJ\n");
    fmt::print("  {:<28}{:>10.1f}\n", "from the heaters", 1e-3 * total.generated);
    fmt::print("  {:<28}{:>10.1f}\n", "to the air", 1e-3 * (total.out - total.in));
    for (const RegionHeat& region : total.regions)
        fmt::print("  {:<28}{:>10.1f}\n", "stored in the " + region.name, 1e-3 * region.stored);
    fmt::print("  {:<28}{:>10.1e}   (rounding can explain {:.1e})\n", "left over", 1e-3 * total.left_over,
               1e-3 * (1e-10 * total.gross + total.floor));
    fmt::print("\nThe last step, mean over its 2 s\n{}\n", to_text(march.balance()));

    fmt::print("Checks by hand\n");
    demo::Checks checks;
    checks.holds(std::abs(by_hand - march[used]) <= 1e-9 * by_hand,
                 fmt::format("power times time is {:.1f} kJ, the march has booked {:.1f} kJ", 1e-3 * by_hand,
                             1e-3 * march[used]));
    checks.holds(std::abs(march[used] - march[given] - stored) <= 1e-9 * by_hand,
                 fmt::format("what was not given to the air, {:.1f} kJ, is in the steel", 1e-3 * stored));
    const double mass = 0.40 * 7850.0 * 0.60 * 0.06;
    const double quickest = mass * 490.0 * (set_point - 22.0) / full_power;
    checks.holds(reached > 0.9 * quickest && reached < 1.4 * quickest,
                 fmt::format("all power into the steel alone would take {:.0f} s", quickest));
    checks.holds(march[peak].value < set_point + 15.0, "the overshoot stays below 15 K");
    checks.holds(total.balanced() && march.balance().balanced(),
                 "the heat balance of the last step and of the run close");
    checks.holds(march.factorisations() == 1, "one factor served all 1800 steps");
    fmt::print("\nCautions\n"
               "  The sensor sees its own place: at the set point the corners of the working face are still colder.\n"
               "  A real thermostat also lags; a rod's sheath runs hotter than this model of one material shows.\n");
    return checks.failed();
}
