using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>The bank of a definition that has no learning section.</summary>
public static class DefaultBank
{
    /// <summary>The settings.</summary>
    public static ImmutableArray<SettingOptions> Settings { get; } =
    [
        new SgdSetting(0.003, 0, 1e-6),
        new SgdSetting(0.01, 0, 1e-6),
        new SgdSetting(0.03, 0, 1e-6),
        new SgdSetting(0.1, 0, 1e-6),
    ];
}
