using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Web.Views;

/// <summary>What a view shows: a window, a slice or the whole stream, and how far back.</summary>
/// <param name="Window">The window's name in links.</param>
/// <param name="Slice">The slice's name in links, or empty for the whole stream.</param>
/// <param name="Past">How far back curves go.</param>
/// <param name="Notice">What of the query could not be had, or null.</param>
internal sealed record ViewChoice(string Window, string Slice, PastSpan Past, string? Notice)
{
    /// <summary>The window of the last labels.</summary>
    public const string LastLabels = "last";

    /// <summary>All labels since the stream began.</summary>
    public const string All = "all";

    private const double EnoughPromised = 30;
    private const int WindowsPerPast = 6;

    /// <summary>Where a query leaves out the window, it is the shortest one that promised enough bad outcomes to be judged by.</summary>
    public static ViewChoice Of(HealthSnapshot health, HealthOptions options, ViewQuery query)
    {
        string? notice = null;
        string slice = query.Slice ?? "";
        if (slice.Length > 0 && Find(health, slice) is null)
        {
            notice = $"There are no figures for the slice {slice} now; this is the whole stream.";
            slice = "";
        }
        bool isKnown = query.Window == All || query.Window == LastLabels && slice.Length == 0 || options.Windows.Any(w => w.Name == query.Window);
        if (query.Window is not null && !isKnown) notice ??= $"There is no window {query.Window} here.";
        string window = isKnown ? query.Window! : DefaultWindow(health, options, slice);
        var past = PastSpan.All.FirstOrDefault(p => p.Name == query.Past);
        if (query.Past is not null && past is null) notice ??= $"Curves do not go {query.Past} back.";
        return new ViewChoice(window, slice, past ?? DefaultPast(health, options, window), notice);
    }

    /// <summary>The slice of that name, or null.</summary>
    public static SliceFigures? Find(HealthSnapshot health, string slice) => health.Slices.FirstOrDefault(s => NameOf(s) == slice);

    /// <summary>A slice's name in links.</summary>
    public static string NameOf(SliceFigures slice) => slice.Value is null ? slice.Field : $"{slice.Field}={slice.Value}";

    private static string DefaultWindow(HealthSnapshot health, HealthOptions options, string slice)
    {
        var windows = Find(health, slice)?.Windows ?? health.Windows;
        foreach (var window in options.Windows.OrderBy(w => w.LengthMicroseconds))
            if (windows.FirstOrDefault(w => w.Name == window.Name)?.Figures.Promised.Expected >= EnoughPromised) return window.Name;
        return options.Windows.MaxBy(w => w.LengthMicroseconds)!.Name;
    }

    private static PastSpan DefaultPast(HealthSnapshot health, HealthOptions options, string window)
    {
        long length = options.Windows.FirstOrDefault(w => w.Name == window)?.LengthMicroseconds ?? long.MaxValue / WindowsPerPast;
        long known = health.History.Days.IsEmpty ? 0 : (health.ClockMicroseconds ?? 0) - health.History.Days[0].FromMicroseconds;
        double minutes = Math.Min(length * (double)WindowsPerPast, known) / 60e6;
        return PastSpan.All.FirstOrDefault(p => p.Minutes >= minutes) ?? PastSpan.All[^1];
    }
}
