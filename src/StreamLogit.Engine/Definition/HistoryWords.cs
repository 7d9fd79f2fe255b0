using System.Collections.Immutable;

namespace StreamLogit.Engine.Definition;

/// <summary>The words in which reasons name histories. "In the last hour" stands for decayed with a half-life of an hour.</summary>
internal static class HistoryWords
{
    private const double Endless = double.PositiveInfinity;

    public static ReasonWords Of(HistoryFeature history)
    {
        string key = string.Join(" and ", history.Per);
        string time = history.Span.Length == 0 ? "" : InWords(history.Span);
        return new ReasonWords(Phrases(history, key, time), Unknown(history, key, time), Missing(history, key));
    }

    private static ImmutableArray<ReasonPhrase> Phrases(HistoryFeature history, string key, string time) => history.Kind switch
    {
        HistoryKind.Count =>
        [
            new(0.5, $"{key} not seen in the last {time}"),
            new(1.5, $"{key} seen once in the last {time}"),
            new(Endless, $"{key} seen ", $" times in the last {time}"),
        ],
        HistoryKind.Sum =>
        [
            new(0, $"{history.Of} of {key} adds up to -", $" in the last {time}", Format: "0.##"),
            new(Endless, $"{history.Of} of {key} adds up to ", $" in the last {time}", Format: "0.##"),
        ],
        HistoryKind.Mean =>
        [
            new(0, $"{history.Of} of {key} is -", $" in the mean of the last {time}", Format: "0.##"),
            new(Endless, $"{history.Of} of {key} is ", $" in the mean of the last {time}", Format: "0.##"),
        ],
        HistoryKind.Deviation =>
        [
            new(0, $"{history.Of} ", $" standard deviations below the mean of {key} in the last {time}", Format: "0.#"),
            new(Endless, $"{history.Of} ", $" standard deviations above the mean of {key} in the last {time}", Format: "0.#"),
        ],
        HistoryKind.Gap =>
        [
            new(1, $"{key} last seen less than a second before"),
            new(120, $"{key} last seen ", " seconds before"),
            new(2 * 3600, $"{key} last seen ", " minutes before", Unit: 60),
            new(2 * 86400, $"{key} last seen ", " hours before", Unit: 3600),
            new(Endless, $"{key} last seen ", " days before", Unit: 86400),
        ],
        HistoryKind.Distinct =>
        [
            new(0.5, $"{key} without any {history.Of} in the last {time}"),
            new(1.5, $"{key} with one {history.Of} in the last {time}"),
            new(Endless, $"{key} with ", $" different values of {history.Of} in the last {time}"),
        ],
        HistoryKind.New =>
        [
            new(0.5, $"{history.Of} seen before with {key} in the last {time}"),
            new(Endless, $"{history.Of} new for {key} in the last {time}"),
        ],
        _ => [new(Endless, "", $" % bad among the known labels of {key} in the last {time}", Unit: 0.01, Format: "0.##")],
    };

    private static string Unknown(HistoryFeature history, string key, string time) => history.Kind switch
    {
        HistoryKind.Gap => $"{key} never seen before",
        _ => $"{key} without {history.Of} in the last {time}",
    };

    private static string Missing(HistoryFeature history, string key) => history.Of is null ? $"{key} missing" : $"{key} or {history.Of} missing";

    // 1h -> hour, 90m -> 90 minutes
    private static string InWords(string duration)
    {
        int end = duration.AsSpan().LastIndexOfAnyInRange('0', '9') + 1;
        string unit = duration[end..] switch
        {
            "ms" => "millisecond",
            "s" => "second",
            "m" => "minute",
            "h" => "hour",
            "d" => "day",
            "w" => "week",
            var other => other,
        };
        return duration[..end] == "1" ? unit : $"{duration[..end]} {unit}s";
    }
}
