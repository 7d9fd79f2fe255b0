using System.Collections.Immutable;
using StreamLogit.Engine.Definition;

namespace StreamLogit.Pipeline.Definition.Sections;

/// <summary><c>health</c>: over which windows health is reported.</summary>
internal static class HealthSection
{
    private const long MinuteMicroseconds = 60_000_000;
    private const long LongestWindowMicroseconds = 366L * 24 * 3600 * 1_000_000;
    private const int MostWindows = 16;
    private const int MostLabels = 1_000_000;

    public static HealthOptions Read(ValueReader? value)
    {
        var defaults = new HealthOptions();
        if (value?.Object() is not { } section) return defaults;
        var options = new HealthOptions
        {
            Windows = ReadWindows(section.Optional("windows")) ?? defaults.Windows,
            LastLabels = section.Optional("lastLabels")?.Whole(1, MostLabels) ?? defaults.LastLabels,
        };
        section.End();
        return options;
    }

    private static ImmutableArray<HealthWindow>? ReadWindows(ValueReader? value)
    {
        if (value?.List("durations", MostWindows) is not { } items) return null;
        var windows = ImmutableArray.CreateBuilder<HealthWindow>();
        foreach (var item in items)
        {
            if (item.Duration(MinuteMicroseconds, LongestWindowMicroseconds) is not { } length) continue;
            if (length % MinuteMicroseconds != 0)
            {
                item.Error($"a window is a whole number of minutes, found {item.Value.Describe()}");
                continue;
            }
            if (windows.FirstOrDefault(window => window.LengthMicroseconds == length) is { } same)
            {
                item.Error($"the window {Quoted.Text(same.Name)} is as long: keep one");
                continue;
            }
            windows.Add(new HealthWindow(item.Value.Text, length));
        }
        return windows.ToImmutable();
    }
}
