using System.Collections.Immutable;

namespace StreamLogit.Engine.Learning;

/// <summary>The coefficients of one setting.</summary>
/// <param name="Name">The setting.</param>
/// <param name="Intercept">Its intercept.</param>
/// <param name="Coefficients">Its coefficients, for every slot that an event has used.</param>
public sealed record SettingModel(string Name, double Intercept, ImmutableArray<NamedCoefficient> Coefficients)
{
    /// <summary>How many of the coefficients are not exactly 0.</summary>
    public int NonZero => Coefficients.Count(coefficient => coefficient.Value != 0);
}
