"""Does a PI law hold a press platen at 120 degC? Tuned and tried on a compact model, then on the whole body."""
import tepor

power = tepor.Parameter("heater power", 600.0)  # W in all heaters, for a depth of 0.4 m
drawing = tepor.Section()
drawing.rectangle("platen", (0.0, 0.0), (0.30, 0.05))
for x in (0.05, 0.15, 0.25):
    drawing.circle("heater", (x, 0.02), 0.008)
drawing.rest("air")
platen = tepor.Body(drawing.mesh(size=0.008, frame=tepor.planar(0.4)))
platen.material("platen", 45.0, density=7850.0, specific_heat=470.0)
platen.material("heater", 16.0, density=7900.0, specific_heat=500.0)
platen.generation("heater", total=power)
platen.film("air", 20.0, 22.0)  # W/(m2 K), degC

sensor, step, goal = tepor.at(0.10, 0.045), 5.0, 120.0  # m, s, degC
field = platen.steady()
plant = platen.compact([power], [sensor], sample_time=step, tolerance=1e-3)
facts, gain, full = plant.facts(), plant.steady_gain(), platen.march(field, step=step)
probe, heater = full.watch(sensor), full.drive(power)
total = worst = 0.0
reading = small = field[sensor]
for i in range(1440):  # two hours
    total += (goal - reading) * step / 900.0  # reset time [s]; the gain is eight times the body's own
    share = 600.0 + 8.0 / gain * (goal - reading + total)
    full.set(heater, share)
    full.advance()
    small, reading = plant.advance(share)[0], full.read(probe)
    worst = max(worst, abs(small - reading))
    if i == 119:
        early = reading
print(f"compact model     {facts.order} states, error at most {100 * facts.error_bound / facts.peak_gain:.3f} % of the peak gain")
print(f"sensor at 600 W   {field[sensor]:8.2f} degC, {gain:.4f} K/W")
print(f"after ten minutes {early:8.3f} degC")
print(f"after two hours   {reading:8.3f} degC (goal {goal:.0f}), power {share:.2f} W")
print(f"model off by      {worst:8.4f} K at most")
print(f"mean of the last step: {full.balance()}")
print(tepor.CAUTION_TOUCH)
