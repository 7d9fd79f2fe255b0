using System.Collections.Immutable;
using StreamLogit.Engine.Health.Metrics;

namespace StreamLogit.Engine.Health.Drift;

/// <summary>Compares the counts of a window with those of the reference period.</summary>
internal static class DriftComparison
{
    private const double PseudoCount = 0.5;
    private const double NumberShare = 0.1;
    private const double CategoryShare = 0.01;

    /// <summary>The drift of every feature that has a distribution, the one that moved most first.</summary>
    public static ImmutableArray<FeatureDrift> Of(ImmutableArray<DriftProbe> probes, DriftCounts reference, DriftCounts window, bool isReferenceComplete)
    {
        var drifts = new List<FeatureDrift>(probes.Length);
        for (int feature = 0; feature < probes.Length; feature++)
            if (probes[feature].Source != DriftSource.None) drifts.Add(OfFeature(probes[feature], feature, reference, window, isReferenceComplete));
        // Stable, so that features that cannot be told apart stay in the definition's order.
        return [.. drifts.OrderByDescending(d => double.IsNaN(d.Psi) ? double.NegativeInfinity : d.Psi - d.PsiByChance)];
    }

    /// <summary>The index of one feature, without what needs a reference distribution.</summary>
    public static double PsiOf(DriftProbe probe, DriftCounts reference, DriftCounts window, out int cells)
    {
        Span<double> ofReference = stackalloc double[DriftProbe.CategoryCells + 1], ofWindow = stackalloc double[DriftProbe.CategoryCells + 1];
        cells = probe.Source == DriftSource.Category
            ? GroupCategory(probe, reference.Cells, window.Cells, ofReference, ofWindow)
            : GroupNumber(probe, reference.Cells, window.Cells, ofReference, ofWindow);
        double referenceWeight = 0, windowWeight = 0;
        for (int i = 0; i < cells; i++)
        {
            referenceWeight += ofReference[i];
            windowWeight += ofWindow[i];
        }
        if (!(referenceWeight > 0 && windowWeight > 0)) return double.NaN;
        // Shares become counts of as many events as the thinned ones tell as much as.
        for (int i = 0; i < cells; i++)
        {
            ofReference[i] *= reference.EffectiveCount / referenceWeight;
            ofWindow[i] *= window.EffectiveCount / windowWeight;
        }
        return PopulationStability.Of(ofReference[..cells], ofWindow[..cells], PseudoCount);
    }

    private static FeatureDrift OfFeature(DriftProbe probe, int feature, DriftCounts reference, DriftCounts window, bool isReferenceComplete)
    {
        double psi = double.NaN;
        int cells = 0;
        if (isReferenceComplete) psi = PsiOf(probe, reference, window, out cells);
        double n = reference.EffectiveCount, m = window.EffectiveCount;
        return new FeatureDrift(
            probe.Name, psi, cells,
            PopulationStability.ByChance(cells, n, m), PopulationStability.ByChance95(cells, n, m),
            Missing(window), Missing(reference), Unseen(window), Unseen(reference));

        double Missing(DriftCounts counts) => counts.Numbers[DriftCounts.Missing(feature)] / counts.Numbers[DriftCounts.Weight];
        double Unseen(DriftCounts counts) => counts.Numbers[DriftCounts.Unseen(feature)] / counts.Numbers[DriftCounts.Weight];
    }

    /// <summary>Neighbouring cells until each group has a tenth of the reference; missing values stay apart.</summary>
    private static int GroupNumber(DriftProbe probe, double[] reference, double[] window, Span<double> ofReference, Span<double> ofWindow)
    {
        int missing = probe.FirstCell + probe.Cells - 1;
        double present = 0;
        for (int cell = probe.FirstCell; cell < missing; cell++) present += reference[cell];
        int groups = 0;
        double before = 0;
        for (int cell = probe.FirstCell; cell < missing; cell++)
        {
            ofReference[groups] += reference[cell];
            ofWindow[groups] += window[cell];
            before += reference[cell];
            if (ofReference[groups] >= NumberShare * present * (1 - 1e-9) && before < present) groups++;
        }
        // What is left at the upper end is too little for a group of its own.
        if (groups > 0 && ofReference[groups] < NumberShare / 2 * present)
        {
            ofReference[groups - 1] += ofReference[groups];
            ofWindow[groups - 1] += ofWindow[groups];
            (ofReference[groups], ofWindow[groups]) = (0, 0);
        }
        else
        {
            groups++;
        }
        if (reference[missing] == 0 && window[missing] == 0) return groups;
        (ofReference[groups], ofWindow[groups]) = (reference[missing], window[missing]);
        return groups + 1;
    }

    /// <summary>Each cell by itself, those with less than a hundredth of the reference together.</summary>
    private static int GroupCategory(DriftProbe probe, double[] reference, double[] window, Span<double> ofReference, Span<double> ofWindow)
    {
        double total = 0;
        for (int cell = probe.FirstCell; cell < probe.FirstCell + probe.Cells; cell++) total += reference[cell];
        int groups = 1; // the first one takes the rare
        for (int cell = probe.FirstCell; cell < probe.FirstCell + probe.Cells; cell++)
        {
            bool isRare = reference[cell] < CategoryShare * total;
            int group = isRare ? 0 : groups++;
            ofReference[group] += reference[cell];
            ofWindow[group] += window[cell];
        }
        if (ofReference[0] > 0 || ofWindow[0] > 0) return groups;
        ofReference[1..groups].CopyTo(ofReference);
        ofWindow[1..groups].CopyTo(ofWindow);
        return groups - 1;
    }
}
