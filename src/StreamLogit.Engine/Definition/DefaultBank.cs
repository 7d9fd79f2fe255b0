using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>
/// Banks of 16 settings for those who do not want to choose: memories from about a thousand labels to all of them, so that the blend finds
/// the right one by itself, again and again if the stream drifts.
/// </summary>
public static class DefaultBank
{
    /// <summary>The most dense coefficients up to which newton is quick enough to be there unasked.</summary>
    private const int MostForNewton = 64;

    /// <summary>The settings for any features. The step grows with the memory, so that the pace of learning stays much the same.</summary>
    public static ImmutableArray<SettingOptions> Settings { get; } =
    [
        new AdagradSetting(0.02, 10_000), new AdagradSetting(0.05, 10_000), new AdagradSetting(0.2, 10_000), new AdagradSetting(0.4, 10_000),
        new AdagradSetting(0.1, 30_000), new AdagradSetting(0.2, 30_000), new AdagradSetting(0.4, 30_000),
        new AdagradSetting(0.1, 100_000), new AdagradSetting(0.4, 100_000), new AdagradSetting(0.8, 100_000), new AdagradSetting(0.8, 300_000),
        new FtrlSetting(0.3, 1, 0, 0), new FtrlSetting(1.2, 1, 0, 0), new FtrlSetting(2.4, 1, 0, 0), new FtrlSetting(2.4, 10, 0, 0),
        new FtrlSetting(5, 10, 0, 0),
    ];

    /// <summary>The settings for streams without categories: newton, which learns as fast as possible, with eight memories, and others beside it.</summary>
    public static ImmutableArray<SettingOptions> DenseSettings { get; } =
    [
        new NewtonSetting(1, 1), new NewtonSetting(0.99999, 1), new NewtonSetting(0.9999, 1), new NewtonSetting(0.9997, 1),
        new NewtonSetting(0.999, 1), new NewtonSetting(0.997, 1), new NewtonSetting(0.99, 1), new NewtonSetting(0.97, 1),
        new SgdSetting(0.003, 0, 0), new SgdSetting(0.01, 0, 0), new SgdSetting(0.03, 0, 0), new SgdSetting(0.5, 0.5, 0),
        new AdagradSetting(0.1, 0), new AdagradSetting(0.05, 3_000), new AdagradSetting(0.2, 30_000), new AdagradSetting(1, 300_000),
    ];

    /// <summary>The settings that suit these features. Newton cannot let the coefficients of one feature fade alone.</summary>
    public static ImmutableArray<SettingOptions> For(ImmutableArray<FeatureOptions> features) =>
        features.Any(feature => feature is CategoryFeature || feature.ForgetHalfLifeMicroseconds > 0) || features.Sum(feature => feature.DenseCoefficients) is < 1 or > MostForNewton
            ? Settings
            : DenseSettings;
}
