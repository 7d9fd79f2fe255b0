using System.Buffers;
using System.Text;
using System.Text.Json;
using CsCheck;
using StreamLogit.Engine.Decisions;
using StreamLogit.Engine.Definition;
using StreamLogit.Pipeline.Formats;

namespace StreamLogit.Pipeline.Tests.Formats;

public sealed class ScoreJsonTests
{
    private static readonly EngineDefinition Definition = Schemas.Definition with
    {
        Features = [new NumberFeature("a \"quoted\" näme", NumberScale.None), new CategoryFeature(["x", "y"])],
        Decision = new DecisionOptions { Cutoff = 1e-7, Reasons = 2 },
    };

    private static JsonElement Write(string id, double probability, double logOdds, bool isAlert = false, params Reason[] reasons)
    {
        string record = $$"""{"id":{{JsonSerializer.Serialize(id)}},"time":"2026-03-01T08:15:30.12Z"}""";
        var batch = ScoredBatch.Of(Definition, 1, Encoding.Latin1.GetString(Encoding.UTF8.GetBytes(record)));
        batch.Scores.Add(out var room) = new Score
        {
            Probability = probability,
            LogOdds = logOdds,
            IsAlert = isAlert,
            Version = long.MaxValue,
            ReasonCount = reasons.Length,
        };
        reasons.CopyTo(room);
        var buffer = new ArrayBufferWriter<byte>();
        new ScoreJson(Definition).Write(batch.Records, batch.Scores, 0, buffer);
        using var json = JsonDocument.Parse(buffer.WrittenMemory);
        return json.RootElement.Clone();
    }

    [Fact]
    public void Write_Alert_HasAllParts()
    {
        var score = Write("t\"1\n", 0.25, -1.5, isAlert: true, new Reason(1, -0.1), new Reason(0, 0.0500004));

        Assert.Equal(
            ["id", "time", "probability", "logOdds", "decision", "cutoff", "version", "reasons"], score.EnumerateObject().Select(p => p.Name));
        Assert.Equal("t\"1\n", score.GetProperty("id").GetString());
        Assert.Equal("2026-03-01T08:15:30.120Z", score.GetProperty("time").GetString());
        Assert.Equal("alert", score.GetProperty("decision").GetString());
        Assert.Equal(1e-7, score.GetProperty("cutoff").GetDouble());
        Assert.Equal(long.MaxValue, score.GetProperty("version").GetInt64());
        Assert.Equal(
            [("x & y", -0.1), ("a \"quoted\" näme", 0.05)],
            score.GetProperty("reasons").EnumerateArray().Select(r => (r.GetProperty("feature").GetString()!, r.GetProperty("contribution").GetDouble())));
    }

    [Fact]
    public void Write_History_SaysItInWords()
    {
        var count = new HistoryFeature(HistoryKind.Count, ["card"]) { HalfLifeMicroseconds = 3_600_000_000, Span = "1h" };
        var gap = new HistoryFeature(HistoryKind.Gap, ["a \"b\"", "c"]);
        var json = new ReasonJson(count);
        Assert.Equal(
            """{"feature":"count per card over 1h","words":"card seen 6 times in the last hour","contribution":0.5}""", Written(json, new Reason(0, 0.5, 5.7)));
        Assert.Contains("\"card missing\"", Written(json, new Reason(0, 0, double.NaN)), StringComparison.Ordinal);
        Assert.Contains("\"a \\\"b\\\" and c last seen 3 hours before\"", Written(new ReasonJson(gap), new Reason(0, 0, 10_900)), StringComparison.Ordinal);
        Assert.Contains("never seen before", Written(new ReasonJson(gap), new Reason(0, 0, ReasonWords.UnknownFigure)), StringComparison.Ordinal);
        Assert.InRange(Written(json, new Reason(0, -1e300, double.MaxValue)).Length, 300, json.MaximumLength);

        static string Written(ReasonJson json, Reason reason)
        {
            var room = new byte[json.MaximumLength];
            return Encoding.UTF8.GetString(room, 0, json.Write(reason, room));
        }
    }

    [Fact]
    public void Write_AnyDoubles_ReadBackToTheSameBits() => Gen.Double.Where(double.IsFinite).Array[2].Sample(values =>
    {
        var score = Write("t", values[0], values[1]);

        Assert.Equal(BitConverter.DoubleToInt64Bits(values[0]), BitConverter.DoubleToInt64Bits(score.GetProperty("probability").GetDouble()));
        Assert.Equal(BitConverter.DoubleToInt64Bits(values[1]), BitConverter.DoubleToInt64Bits(score.GetProperty("logOdds").GetDouble()));
    }, seed: "0000000000000", iter: 2000);

    [Fact]
    public void Write_LongestEverything_FitsIntoItsRoom()
    {
        string id = new('\u0001', 5000);
        var longest = new Reason(0, -1.2345678901234567e+308);

        Assert.Equal(id, Write(id, double.Epsilon, -1.2345678901234567e-308, false, longest, longest).GetProperty("id").GetString());
    }
}
