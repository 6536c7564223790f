#pragma once
// Heat balances as text.

#include <cmath>
#include <tepor/output/table.hpp>
#include <tepor/output/text.hpp>

namespace tepor {

namespace detail {

/// Where a flow is unbounded, in the words of the balance.
inline std::string unbounded_text(const FaceHeat& face) {
    return fmt::format("unbounded at ({}, {}), where two prescribed temperatures differ", significant(face.unbounded_x),
                       significant(face.unbounded_y));
}

inline std::string faces_table(const Balance& b) {
    bool any[4] = {};
    for (const FaceHeat& f : b.faces) {
        any[0] = any[0] || f.film != 0.0;
        any[1] = any[1] || f.radiation != 0.0;
        any[2] = any[2] || f.flux != 0.0;
        any[3] = any[3] || f.prescribed != 0.0;
    }
    static constexpr const char* kind[4] = {"by film", "by radiation", "by flux", "by fixed temp."};
    std::vector<std::string> header{"face", "area [m2]", "out [W]"};
    for (int k = 0; k < 4; ++k)
        if (any[k]) header.emplace_back(kind[k]);
    TextTable table(std::move(header));
    for (const FaceHeat& f : b.faces) {
        std::vector<TextTable::Cell> row{'"' + f.name + '"', f.area};
        if (f.unbounded) {
            row.emplace_back(unbounded_text(f));
        } else if (f.adiabatic) {
            row.emplace_back("adiabatic: nothing was said on it");
        } else {
            row.emplace_back(f.out);
            const double part[4] = {f.film, f.radiation, f.flux, f.prescribed};
            for (int k = 0; k < 4; ++k)
                if (any[k]) row.emplace_back(part[k]);
        }
        table.row(std::move(row));
    }
    return table.empty() ? std::string() : table.text();
}

inline std::string regions_table(const Balance& b) {
    bool side_loss = false;
    bool stored = false;
    bool any = false;
    for (const RegionHeat& r : b.regions) {
        side_loss = side_loss || r.side_loss != 0.0;
        stored = stored || r.stored != 0.0;
        any = any || r.generated != 0.0;
    }
    if (!any && !side_loss && !stored) return {};
    std::vector<std::string> header{"region", "generated [W]"};
    if (side_loss) header.emplace_back("out of its sides [W]");
    if (stored) header.emplace_back("stored [W]");
    TextTable table(std::move(header));
    for (const RegionHeat& r : b.regions) {
        std::vector<TextTable::Cell> row{'"' + r.name + '"', r.generated};
        if (side_loss) row.emplace_back(r.side_loss);
        if (stored) row.emplace_back(r.stored);
        table.row(std::move(row));
    }
    return table.text();
}

} // namespace detail

TEPOR_INLINE std::string to_text(const Balance& b) {
    using detail::significant;
    std::string out = fmt::format("Heat balance for {}\n", b.size);
    out += detail::faces_table(b);
    if (b.has_unnamed) out += "  the rest of the surface bears no name and is adiabatic\n";
    out += detail::regions_table(b);
    detail::TextTable sums({"in [W]", "generated [W]", "out [W]", "stored [W]"});
    sums.row({b.in, b.generated, b.out, b.stored});
    out += sums.text();
    out += fmt::format(
        "  left over {:.2e} W, {}: the limit is {:.2e} W (1e-10 of the gross traffic of {} W, and a rounding "
        "floor of {:.2e} W)\n",
        b.left_over, b.balanced() ? "balanced" : "NOT BALANCED", 1e-10 * b.gross + b.floor, significant(b.gross),
        b.floor);
    return out;
}

} // namespace tepor
