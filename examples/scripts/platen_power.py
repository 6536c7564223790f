"""What heater power holds the working face of a press platen at 180 degC? The heaters fade as they warm: an own law."""
import tepor

power = tepor.Parameter("rated power", 2500.0)  # W in all heaters together at 20 degC, for a depth of 0.4 m
drawing = tepor.Section()
drawing.rectangle("platen", (0.0, 0.0), (0.60, 0.06))
places = [0.06, 0.18, 0.30, 0.42, 0.54]
for x in places:
    drawing.circle("heater", (x, 0.03), 0.008)
drawing.face("working face", (0.0, 0.06), (0.60, 0.06))
drawing.rest("insulated")
platen = tepor.Body(drawing.mesh(size=0.012, frame=tepor.planar(0.4)))
volume = len(places) * 3.14159265 * 0.008 ** 2 * 0.4


def fading(spot, rated):  # W/m3
    return rated / volume / (1.0 + 0.0008 * (spot.temperature - 20.0))


platen.material("platen", 45.0)
platen.material("heater", 16.0)
platen.generation("heater", per_volume=tepor.law(fading, [power], name="fading heater"))
platen.film("working face", 60.0, 22.0)  # W/(m2 K), degC
platen.film("insulated", 1.5, 22.0)

face = tepor.mean_on("working face")
sized = platen.size_for(power, face, 180.0, between=(500.0, 20000.0))
platen.set(power, sized.value)
field = platen.steady()
print(f"rated power      {sized.value:8.0f} W   ({sized.solves} solves)")
print(f"given when hot   {field[tepor.generated_in('heater')]:8.0f} W")
print(f"working face     {field[face]:8.2f} degC")
print(f"hottest heater   {field[tepor.hottest_in('heater')]:8.2f} degC")
print(field.balance())
print(tepor.CAUTION_TOUCH)
