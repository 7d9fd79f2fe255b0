using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories.Figures;

/// <summary><see cref="HistoryKind.Rate"/>: (bad + prior overall) / (labels + prior).</summary>
internal sealed class RateHistory(HistoryFeature options, HistoryTable table, KnownLabels labels, OverallRate overall, int firstSlot)
    : HistoryEncoding(options, table, firstSlot)
{
    protected override double Figure(HistoryTable table, RecordBatch records, int record)
    {
        var row = table.Row;
        return (labels.Bad(row) + Options.Prior * overall.Value) / (labels.Labels(row) + Options.Prior);
    }

    protected override double Shown(double figure) =>
        Options.Scale == NumberScale.LogOdds ? LogOdds(figure) - LogOdds(overall.Value) : figure;

    private static double LogOdds(double share) => Elementary.Log(share / (1 - share));
}
