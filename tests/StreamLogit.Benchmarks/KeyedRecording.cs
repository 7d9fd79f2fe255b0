using System.Globalization;
using System.Text;

namespace StreamLogit.Benchmarks;

/// <summary>
/// Writes a recording of payments by very many cards to standard output, for the definition keys.json: a few cards pay often, most of them seldom.
/// With u uniform, the card is keys * u^2, so that a quarter of the payments is by a sixteenth of the cards.
/// </summary>
internal static class KeyedRecording
{
    public static int Write(int keys, int events)
    {
        using var output = new StreamWriter(Console.OpenStandardOutput(), new UTF8Encoding(false), 1 << 20);
        var random = new Random(1);
        var start = new DateTime(2026, 3, 1, 0, 0, 0, DateTimeKind.Utc);
        for (int i = 0; i < events; i++)
        {
            double u = random.NextDouble();
            output.Write(string.Create(
                CultureInfo.InvariantCulture,
                $$"""{"id":"k-{{i}}","time":"{{start.AddMilliseconds(20L * i):yyyy-MM-dd'T'HH:mm:ss.fff}}Z","card":"c-{{(int)(keys * u * u)}}","price":{{random.Next(1, 400)}},"label":{{(random.Next(100) == 0 ? 1 : 0)}}}"""));
            output.Write('\n');
        }
        return 0;
    }
}
