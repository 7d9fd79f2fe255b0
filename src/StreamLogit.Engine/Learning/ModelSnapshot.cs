using System.Collections.Immutable;

namespace StreamLogit.Engine.Learning;

/// <summary>The coefficients of every setting with the names of their features. Immutable.</summary>
/// <param name="Version">Labels learned.</param>
/// <param name="Settings">The settings in the bank's order.</param>
/// <param name="Blend">Their weights in the blend, which sum to 1.</param>
public sealed record ModelSnapshot(
    long Version, ImmutableArray<SettingModel> Settings, ImmutableArray<BlendWeight> Blend);
