"""What the scripts of this folder share to find roots in high precision."""
from mpmath import mpf


def false_position(f, low, high, digits):
    """The root of f between low and high to 10^-digits, the end that stays put weighed half (the
    Illinois rule); None where f has one sign at both."""
    at_low, at_high = f(low), f(high)
    if at_low * at_high > 0:
        return None
    x = low
    while at_low != 0 and at_high != 0:
        previous, x = x, (low * at_high - high * at_low) / (at_high - at_low)
        at_x = f(x)
        if at_x == 0 or abs(x - previous) < mpf(10) ** -digits:
            return x
        if at_x * at_high < 0:
            low, at_low = high, at_high
        else:
            at_low /= 2
        high, at_high = x, at_x
    return low if at_low == 0 else high
