#pragma once
// Balance: where the heat comes from and where it goes.

#include <string>
#include <vector>

namespace tepor {

/// Heat leaving through one face [W] (negative: entering), by kind of condition.
struct FaceHeat {
    std::string name;
    double out = 0.0; ///< all kinds together
    double film = 0.0;
    double radiation = 0.0;
    double flux = 0.0;
    double prescribed = 0.0;  ///< through prescribed temperatures; corners shared as described in the README
    double area = 0.0;        ///< [m2]
    bool adiabatic = false;   ///< nothing was said on any part of it
    bool unbounded = false;   ///< two prescribed temperatures differ at one of its corners: no finite flow of its own
    double unbounded_x = 0.0; ///< where [m]
    double unbounded_y = 0.0;
};

struct RegionHeat {
    std::string name;
    double generated = 0.0; ///< [W], local heat included
    double side_loss = 0.0; ///< [W] out through side films
    double stored = 0.0;    ///< [W], rate of storage
};

/// Heat balance of a field or a step [W], for the size the frame states. Never closed by subtraction: what is left over
/// is printed beside what rounding can explain.
struct Balance {
    double in = 0.0;        ///< through faces and side films, inward parts
    double out = 0.0;       ///< outward parts
    double generated = 0.0; ///< by Generation and LocalHeat
    double stored = 0.0;    ///< rate of storage; 0 in a steady state
    double left_over = 0.0; ///< in + generated - out - stored, as computed
    double gross = 0.0;     ///< half the sum of absolute flows through cell sides of faces, of sources and of storage
    double floor = 0.0;     ///< what rounding can leave over
    std::vector<FaceHeat> faces; ///< faces may overlap, so these need not add up to in and out
    std::vector<RegionHeat> regions;
    std::string size;         ///< what the watts are for, such as "1 m2 of wall"
    bool has_unnamed = false; ///< part of the surface belongs to no face and is adiabatic

    /// |left over| <= 1e-10 of the gross traffic + the rounding floor.
    [[nodiscard]] bool balanced() const noexcept {
        const double limit = 1e-10 * gross + floor;
        return left_over <= limit && left_over >= -limit;
    }
};

} // namespace tepor
