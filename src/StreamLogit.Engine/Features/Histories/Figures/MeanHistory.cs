using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Features.Histories.Figures;

/// <summary><see cref="HistoryKind.Mean"/>.</summary>
internal sealed class MeanHistory(HistoryFeature options, HistoryTable table, ValueTotal total, int firstSlot)
    : HistoryEncoding(options, table, firstSlot)
{
    protected override double Figure(HistoryTable table, RecordBatch records, int record)
    {
        double weight = total.Weight(table.Row);
        return weight < SmallestWeight ? ReasonWords.UnknownFigure : total.Sum(table.Row) / weight;
    }
}
