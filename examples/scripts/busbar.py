"""What current may a bare copper busbar carry, so that it stays below 90 degC? Resistance rises with temperature."""
import tepor

width, height = 0.060, 0.010  # m
area = width * height
current = tepor.Parameter("current", 1000.0)  # A


def joule(spot, amps):  # W/m3; resistivity of copper at 20 degC and its rise: common practice, no source
    return 1.724e-8 * (1.0 + 0.00393 * (spot.temperature - 20.0)) * (amps / area) ** 2


drawing = tepor.Tiles()
drawing.add("copper", (0.0, 0.0), (width, height))
bar = tepor.Body(drawing.mesh(size=0.005, frame=tepor.planar(1.0)))  # watts per metre of bar
bar.material("copper", 390.0)
bar.generation("copper", per_volume=tepor.law(joule, [current], name="Joule heat"))
for face in ("left", "right", "bottom", "top"):
    bar.film(face, 7.0, 35.0)  # W/(m2 K), degC
    bar.radiation(face, 0.4, 35.0)

hottest = tepor.hottest_in("copper")
sized = bar.size_for(current, hottest, 90.0, kind="at most", between=(100.0, 4000.0))
bar.set(current, sized.value)
field = bar.steady()
print(f"current      {sized.value:8.0f} A   ({sized.solves} solves)")
print(f"hottest      {field[hottest]:8.2f} degC")
print(f"heat         {field[tepor.generated_in('copper')]:8.1f} W/m")
print(field.balance())
print(tepor.CAUTION_FIRE)
