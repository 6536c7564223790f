"""Which spacing of aluminium fins carries most heat from a plate 0.2 m wide? The film falls when fins stand close."""
import tepor

length, thickness, base, air, plate = 0.040, 0.002, 80.0, 25.0, 0.2  # m, m, degC, degC, m


def film(gap):  # W/(m2 K): our own smooth law for a narrow channel, for this exercise
    return 8.0 * (1.0 - 2.718 ** (-(gap / 0.006) ** 1.5))


def heat_of_fin(h):  # W per metre of fin, tip included
    fin = tepor.Body(tepor.layers([("fin", length, 1)], frame=tepor.planar(thickness), element="exact segment"))
    fin.material("fin", 200.0)
    fin.side_film("fin", h, air, perimeter=2.0)  # both sides of one metre
    fin.fixed_temperature("inner", base)
    fin.film("outer", h, air)
    return fin.steady()


best = None
print("  gap [mm]   fins   h [W/(m2 K)]   heat [W/m]")
for gap in [0.002 * i for i in range(1, 11)]:
    count = int(plate / (gap + thickness))
    h = film(gap)
    field = heat_of_fin(h)
    heat = count * (field[tepor.heat_in_through("inner")] + h * gap * (base - air))
    print(f"{1000 * gap:10.1f} {count:6d} {h:14.2f} {heat:12.1f}")
    if best is None or heat > best[0]:
        best = (heat, gap, field)
print(f"best gap {1000 * best[1]:.0f} mm: {best[0]:.1f} W per metre of plate")
print(best[2].balance())
