"""How far apart must three buried cables lie, so that the middle one stays at 70 degC? Soil and load are invented."""
import tepor

depth, radius, loss, soil, ground = 0.8, 0.035, 40.0, 1.0, 15.0  # m, m, W/m each, W/(m K), degC


def middle(spacing):
    drawing = tepor.Section()
    drawing.rectangle("soil", (-8.0, -8.0), (8.0, 0.0))
    for i in (-1, 0, 1):
        drawing.circle("cable " + "lmr"[i + 1], (i * spacing, -depth), radius)
    drawing.face("ground", (-8.0, 0.0), (8.0, 0.0))
    site = tepor.Body(drawing.mesh(size=0.4, element="triangle 2"))
    site.material("soil", soil)
    for name in "lmr":
        site.material("cable " + name, 5.0)
        site.generation("cable " + name, total=loss)
    site.fixed_temperature("ground", ground)
    field = site.steady()
    return field[tepor.mean_in("cable m")], field


low, high, target = 0.08, 1.5, 55.0
while high - low > 0.001:  # the temperature falls with the spacing
    spacing = 0.5 * (low + high)
    temperature, field = middle(spacing)
    low, high = (spacing, high) if temperature > target else (low, spacing)
print(f"spacing       {spacing:7.3f} m")
print(f"middle cable  {temperature:7.2f} degC (limit {target:.0f})")
print(field.balance())
print(tepor.CAUTION_FIRE)
