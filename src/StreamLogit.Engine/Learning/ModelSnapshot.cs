using System.Collections.Immutable;

namespace StreamLogit.Engine.Learning;

/// <summary>The coefficients of every setting with the names of their features. Immutable.</summary>
/// <param name="Version">Labels learned.</param>
/// <param name="Settings">The settings in the bank's order.</param>
/// <param name="Blend">Their weights in the blend, which sum to 1.</param>
public sealed record ModelSnapshot(
    long Version, ImmutableArray<SettingModel> Settings, ImmutableArray<BlendWeight> Blend);

/// <summary>The coefficients of one setting.</summary>
/// <param name="Name">The setting.</param>
/// <param name="Intercept">Its intercept.</param>
/// <param name="Coefficients">Its coefficients, for every slot that an event has used.</param>
public sealed record SettingModel(string Name, double Intercept, ImmutableArray<NamedCoefficient> Coefficients);

/// <summary>A coefficient: <c>amount</c>, <c>amount missing</c>, <c>country=QX</c>.</summary>
public readonly record struct NamedCoefficient(string Feature, double Value);

/// <summary>A setting's weight in the blend.</summary>
public readonly record struct BlendWeight(string Name, double Weight);
