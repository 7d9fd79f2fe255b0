using StreamLogit.Engine.Definition;

namespace StreamLogit.Engine.Tests;

public sealed class LabelledEventTests
{
    private const long Second = 1_000_000;

    [Fact]
    public void Labelled_EventsAndLateLabels_ShowsThemAsTheyWereScored()
    {
        var seen = new List<(double X, double LogOdds, double SettingLogOdds, int Label, double Weight, long Waited)>();
        var engine = new ScoringEngine(Definitions.Of(new NumberFeature("x", NumberScale.None)))
        {
            Labelled = (in LabelledEvent e) => seen.Add((
                e.Vector.Values[0], e.LogOdds, e.SettingLogOdds[0], e.Label, e.Weight, (e.KnownAtMicroseconds - e.ScoredAtMicroseconds) / Second)),
        };
        var run = new EngineRun(engine).Take(
            """{"id":"late","time":"2026-03-01T00:00:00Z","x":3}""",
            """{"id":"now","time":"2026-03-01T00:00:01Z","x":1,"label":0,"weight":2}""",
            """{"id":"never","time":"2026-03-01T00:00:02Z","x":1}""",
            """{"id":"late","label":1,"time":"2026-03-01T00:00:07Z"}""");
        Assert.Empty(run.Rejects);
        Assert.Equal([(1, 0, 0, 0, 2, 0L), (3, 0, 0, 1, 1, 7L)], seen);
    }

    [Fact]
    public void Corrected_ALabelThatCorrectsAnother_TellsWhatIsTakenBack()
    {
        var seen = new List<(int Label, double Weight, double TakenBack)>();
        LabelledEventTaker see = (in LabelledEvent e) => seen.Add((e.Label, e.Weight, e.TakenBackWeight));
        var engine = new ScoringEngine(Definitions.Of(new NumberFeature("x", NumberScale.None)))
        {
            Labelled = see,
            Corrected = see,
        };
        new EngineRun(engine).Take(
            """{"id":"a","time":"2026-03-01T00:00:00Z","x":3,"weight":2}""",
            """{"id":"a","label":1,"time":"2026-03-01T00:00:07Z"}""",
            """{"id":"a","label":1,"time":"2026-03-01T00:00:08Z"}""",
            """{"id":"a","label":0,"time":"2026-03-01T00:00:09Z","weight":5}""");
        Assert.Equal([(1, 2, 0), (0, 5, 2)], seen);
    }

    [Fact]
    public void Labelled_SomebodyLooksOn_ChangesNoScore()
    {
        string[] records = [.. Enumerable.Range(0, 200).Select(i => FormattableString.Invariant(
            $$"""{"id":"{{i}}","time":"2026-03-01T00:{{i / 60:00}}:{{i % 60:00}}Z","x":{{i % 7}},"label":{{(i * i) % 3 % 2}}}"""))];
        var definition = Definitions.Of(new NumberFeature("x", NumberScale.None));
        var watched = new EngineRun(new ScoringEngine(definition) { Labelled = (in LabelledEvent _) => { } }).Take(records);
        Assert.Equal(new EngineRun(definition).Take(records).Scores.Select(s => s.LogOdds), watched.Scores.Select(s => s.LogOdds));
    }
}
