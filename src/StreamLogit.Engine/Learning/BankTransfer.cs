using System.Collections.Immutable;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>Brings what a saved bank learned into a bank that may have other settings: equal ones go on, new ones start from the saved blend.</summary>
internal sealed class BankTransfer(BankLayout layout, ImmutableArray<LearnerGroup> groups, SlotBlocks blocks, Blend blend)
{
    /// <exception cref="InvalidStateException">The state is damaged.</exception>
    public BankChange From(SavedBank saved)
    {
        var savedSettings = saved.Layout.Groups
            .SelectMany(group => group.Settings.Select((setting, lane) => (setting.Name, setting.Place, Group: group, Lane: lane)))
            .ToDictionary(setting => setting.Name, StringComparer.Ordinal);
        int[] savedPlaces = new int[layout.SettingCount];
        var copies = new List<RowCopy>();
        var starts = new List<(ILearner Learner, int Lane)>();
        for (int g = 0; g < groups.Length; g++)
        {
            for (int lane = 0; lane < groups[g].Settings.Length; lane++)
            {
                (int place, string name) = layout.Groups[g].Settings[lane];
                ILearner learner = groups[g].Learner;
                if (savedSettings.TryGetValue(name, out var old) && old.Group.NumbersPerSetting == learner.NumbersPerSetting)
                {
                    savedPlaces[place] = old.Place;
                    learner.LoadSetting(lane, saved.RuleNumbers(old.Place));
                    blend.LoadSetting(place, saved.BlendNumbers(old.Place));
                    copies.Add(new RowCopy(learner, lane, StartOf(saved.Layout, old.Group), old.Group, old.Lane));
                }
                else
                {
                    savedPlaces[place] = -1;
                    learner.StartIntercept(lane, saved.BlendedIntercept());
                    starts.Add((learner, lane));
                }
            }
        }
        CopyBlocks(saved, copies, starts);
        BankChange change = Change(saved, savedPlaces);
        if (!change.IsNone || saved.Layout.KeepsLosses != layout.KeepsLosses) SetWeights(saved, savedPlaces);
        return change;
    }

    private void CopyBlocks(SavedBank saved, List<RowCopy> copies, List<(ILearner Learner, int Lane)> starts)
    {
        foreach ((int firstSlot, double[] rows) in saved.Blocks())
        {
            int end = Math.Min(firstSlot + saved.Layout.SlotsPerBlock, blocks.SlotCount);
            for (int slot = firstSlot; slot < end; slot++)
            {
                blocks.Mark([slot]);
                foreach (RowCopy copy in copies) copy.Apply(slot, slot - firstSlot, rows);
                if (starts.Count == 0) continue;
                double coefficient = saved.BlendedCoefficient(slot, rows);
                foreach ((ILearner learner, int lane) in starts) learner.StartCoefficient(slot, lane, coefficient);
            }
        }
    }

    // A new setting gets as much weight as an equal share; the old ones keep their proportions.
    private void SetWeights(SavedBank saved, int[] savedPlaces)
    {
        double[] logWeights = new double[savedPlaces.Length];
        double greatest = double.NegativeInfinity;
        int kept = 0;
        for (int place = 0; place < savedPlaces.Length; place++)
        {
            if (savedPlaces[place] < 0) continue;
            logWeights[place] = Blend.LogWeightOf(saved.BlendNumbers(savedPlaces[place]), saved.Layout.KeepsLosses);
            greatest = Math.Max(greatest, logWeights[place]);
            kept++;
        }
        double total = 0;
        for (int place = 0; place < savedPlaces.Length; place++)
            if (savedPlaces[place] >= 0) total += Elementary.Exp(logWeights[place] - greatest);
        for (int place = 0; place < savedPlaces.Length; place++)
            if (savedPlaces[place] < 0) logWeights[place] = kept == 0 ? 0 : greatest + Elementary.Log(total / kept);
        blend.SetLogWeights(logWeights);
    }

    private BankChange Change(SavedBank saved, int[] savedPlaces)
    {
        string[] names = new string[layout.SettingCount];
        foreach ((int place, string name) in layout.Groups.SelectMany(group => group.Settings)) names[place] = name;
        return new BankChange(
            [.. names.Where((_, place) => savedPlaces[place] >= 0)],
            [.. names.Where((_, place) => savedPlaces[place] < 0)],
            [.. saved.Layout.Groups.SelectMany(group => group.Settings).OrderBy(s => s.Place).Where(s => !savedPlaces.Contains(s.Place)).Select(s => s.Name)],
            [.. savedPlaces]);
    }

    private static int StartOf(BankLayout layout, GroupLayout group) =>
        layout.Groups.TakeWhile(other => other != group).Sum(other => other.RowLength * other.RowsPerSlot) * layout.SlotsPerBlock;

    /// <summary>Where the rows of a setting lie in a saved block, and where they go.</summary>
    private sealed record RowCopy(ILearner Learner, int Lane, int Start, GroupLayout Saved, int SavedLane)
    {
        public void Apply(int slot, int slotInBlock, double[] rows)
        {
            Span<double> to = Learner.Rows(slot, 1);
            int from = Start + slotInBlock * Saved.RowLength * Saved.RowsPerSlot;
            for (int row = 0; row < Saved.RowsPerSlot; row++)
                to[row * Learner.RowLength + Lane] = rows[from + row * Saved.RowLength + SavedLane];
        }
    }
}
