using System.Collections.Immutable;
using StreamLogit.Engine.Learning;

namespace StreamLogit.Engine;

/// <summary>The largest of the coefficients that published scores are made of. Immutable.</summary>
/// <param name="Version">Labels learned when they were found.</param>
/// <param name="ClockMicroseconds">The stream's clock then, in microseconds since 1970, or null before the first record.</param>
/// <param name="Intercept">The intercept.</param>
/// <param name="Used">How many coefficients there are that an event has used.</param>
/// <param name="Coefficients">The largest of them, by their distance from 0.</param>
public sealed record LargestCoefficients(
    long Version, long? ClockMicroseconds, double Intercept, long Used, ImmutableArray<NamedCoefficient> Coefficients);
