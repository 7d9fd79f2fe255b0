using System.Globalization;

namespace StreamLogit.Engine.Tests;

/// <summary>Records as JSON text, at seconds after 1970.</summary>
internal static class RecordText
{
    public static string Event(string id, double seconds, double x, int? label = null) => string.Create(
        CultureInfo.InvariantCulture, $"{{\"id\":\"{id}\",\"time\":{Time(seconds)},\"x\":{x}{(label is null ? "" : $",\"label\":{label}")}}}");

    public static string Label(string id, double seconds, int label) => $"{{\"id\":\"{id}\",\"time\":{Time(seconds)},\"label\":{label}}}";

    public static string Weighted(string record, double weight) =>
        record[..^1] + string.Create(CultureInfo.InvariantCulture, $",\"weight\":{weight}}}");

    public static string Time(double seconds) =>
        $"\"{DateTimeOffset.UnixEpoch.AddSeconds(seconds).ToString("yyyy-MM-ddTHH:mm:ss.fffZ", CultureInfo.InvariantCulture)}\"";
}
