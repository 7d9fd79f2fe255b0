using System.Collections.Immutable;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Web.Views;

/// <summary>Everything that the page shows of one snapshot for one choice.</summary>
internal sealed class HealthView
{
    public HealthView(EngineDefinition definition, HealthMoment moment, ViewChoice choice)
    {
        (Definition, Moment, Choice) = (definition, moment, choice);
        var health = moment.Health;
        Selection = Selection.Of(health, definition.Health, choice);
        var curve = CurveOf(Selection.History);
        var ofStream = choice.Slice.Length == 0 ? curve : CurveOf(health.History);
        Verdict = Verdict.Of(Selection.Figures, Selection.Words, health.Awaiting);
        Tables =
        [
            CurveTables.Promised(curve),
            CurveTables.LogLoss(curve),
            FigureTables.Reliability(Selection.Figures),
            FigureTables.Drift(Selection),
            FigureTables.Delays(Selection.Stream ?? health.Stream),
            FigureTables.LabelledByAge(health),
            CurveTables.Stream(ofStream),
            CurveTables.Blend(ofStream, health.Settings),
            FigureTables.Settings(Selection),
            FigureTables.Windows(health, choice),
            FigureTables.Slices(health, definition.Health, choice),
            NoticeTables.Alarms(health),
            NoticeTables.AlarmChanges(health),
            NoticeTables.Changes(health),
            NoticeTables.Rejects(health, Selection),
            NoticeTables.RejectExamples(moment.Rejects),
            CoefficientTables.Largest(moment.Coefficients, WindowStart(health, definition.Health, choice)),
            CoefficientTables.Moves(moment.Coefficients),
        ];

        IReadOnlyList<CurvePoint> CurveOf(HealthHistory history) =>
            Curves.Of(history, definition.Health.History, choice.Past, health.ClockMicroseconds ?? 0, health.Settings.Length);
    }

    /// <summary>What the engine computes.</summary>
    public EngineDefinition Definition { get; }

    /// <summary>What was known.</summary>
    public HealthMoment Moment { get; }

    /// <summary>What is shown of it.</summary>
    public ViewChoice Choice { get; }

    /// <summary>The figures that this selects.</summary>
    public Selection Selection { get; }

    /// <summary>What stands at the top.</summary>
    public Verdict Verdict { get; }

    /// <summary>Every curve and table.</summary>
    public ImmutableArray<DataTable> Tables { get; }

    private static long WindowStart(HealthSnapshot health, HealthOptions options, ViewChoice choice) =>
        (health.ClockMicroseconds ?? 0) - (options.Windows.FirstOrDefault(w => w.Name == choice.Window)?.LengthMicroseconds ?? health.ClockMicroseconds ?? 0);
}
