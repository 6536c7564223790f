"""Which film coefficient acts on a cooled plate? Found from thermocouples at two powers; readings of an invented test rig."""
import tepor

film = tepor.Parameter("film coefficient", 50.0)      # W/(m2 K), a first guess
k = tepor.Parameter("conductivity", 15.0)             # W/(m K), the certificate says 15 +- 1
power = tepor.Parameter("heat flux of the foil", 5000.0)  # W/m2, measured
plate = tepor.Body(tepor.layers([("plate", 0.020, 4)]))
plate.material("plate", k)
plate.flux_into("inner", power)
plate.film("outer", film, 21.0)

places = [0.002, 0.010, 0.018]  # m, depth of the couples from the foil
reading = {5000.0: [71.6, 68.7, 66.4], 12000.0: [142.0, 135.7, 129.9]}  # degC, read to 0.2 K (one sigma)
readings = [(tepor.at(x), T, 0.2, {power: q}) for q, row in reading.items() for x, T in zip(places, row)]
found = plate.fit([film, (k, 15.0, 1.0)], readings)

print("parameter               value     from       to   (95 %)")
for parameter in (film, k):
    e = found[parameter]
    print(f"{parameter.name:20s} {e.value:8.3f} {e.low:8.3f} {e.high:8.3f}")
fit = found.agreement()
print(f"chi-square {fit.chi_square:.3f} for {fit.degrees_of_freedom} degrees of freedom, probability {fit.goodness:.2f}")
for parameter in (film, k):
    plate.set(parameter, found[parameter].value)
ahead = found.predict(tepor.mean_on("outer"))
print(f"surface at 5000 W/m2  {ahead.value:.2f} degC, {ahead.low:.2f} to {ahead.high:.2f}")
print(plate.steady().balance())
print(tepor.CAUTION_TOUCH)
