using System.Collections.Immutable;
using System.Runtime.InteropServices;
using StreamLogit.Engine.Numerics;
using StreamLogit.Engine.Persistence;

namespace StreamLogit.Engine.Learning;

/// <summary>A bank as a saved state has it, with checks that the state is whole.</summary>
internal sealed class SavedBank
{
    private readonly StateBlocks _state;
    private readonly Dictionary<int, double[]> _numbers = [];
    private readonly double[] _weights;

    /// <exception cref="InvalidStateException">A setting is damaged.</exception>
    public SavedBank(BankLayout layout, StateBlocks state)
    {
        Layout = layout;
        _state = state;
        _weights = new double[layout.SettingCount];
        foreach (GroupLayout group in layout.Groups)
        {
            foreach ((int place, string name) in group.Settings)
            {
                byte[]? bytes = state.Find(BankState.SettingsPart, place);
                if (bytes?.Length != (Blend.NumbersPerSetting + group.NumbersPerSetting) * sizeof(double) || (uint)place >= (uint)_weights.Length)
                    throw new InvalidStateException($"The numbers of setting '{name}' are damaged.");
                _numbers[place] = MemoryMarshal.Cast<byte, double>(bytes).ToArray();
            }
        }
        SetWeights();
    }

    public BankLayout Layout { get; }

    public ImmutableArray<long> BlockNumbers => [.. _state.Read(BankState.CoefficientsPart).Select(block => block.Number)];

    /// <summary>The rows of every block, with the number of its first slot. The rows of the groups follow each other.</summary>
    /// <exception cref="InvalidStateException">A block is damaged.</exception>
    public IEnumerable<(int FirstSlot, double[] Rows)> Blocks()
    {
        foreach ((long number, byte[] bytes) in _state.Read(BankState.CoefficientsPart))
        {
            if (number < 0 || number > (Layout.SlotCount - 1) / Layout.SlotsPerBlock
                || bytes.Length != Layout.DoublesPerSlot * Layout.SlotsPerBlock * sizeof(double))
                throw new InvalidStateException("A block of coefficients is damaged.");
            yield return ((int)number * Layout.SlotsPerBlock, MemoryMarshal.Cast<byte, double>(bytes).ToArray());
        }
    }

    /// <summary>The blend's numbers of a setting.</summary>
    public ReadOnlySpan<double> BlendNumbers(int place) => _numbers[place].AsSpan(0, Blend.NumbersPerSetting);

    /// <summary>The rule's numbers of a setting.</summary>
    public ReadOnlySpan<double> RuleNumbers(int place) => _numbers[place].AsSpan(Blend.NumbersPerSetting);

    /// <summary>The mean intercept of the blend.</summary>
    public double BlendedIntercept() => Enumerable.Range(0, _weights.Length).Sum(place => _weights[place] * RuleNumbers(place)[0]);

    /// <summary>The mean coefficient of the blend in a slot.</summary>
    /// <param name="slot">The slot.</param>
    /// <param name="rows">The rows of its block.</param>
    public double BlendedCoefficient(int slot, double[] rows)
    {
        double sum = 0;
        int start = 0;
        foreach (GroupLayout group in Layout.Groups)
        {
            int row = start + slot % Layout.SlotsPerBlock * group.RowLength * group.RowsPerSlot;
            for (int lane = 0; lane < group.Settings.Length; lane++)
            {
                int place = group.Settings[lane].Place;
                ReadOnlySpan<double> numbers = RuleNumbers(place);
                if (group.RowsPerSlot > 0) sum += _weights[place] * numbers[1] * rows[row + lane];
                else if (slot >= Layout.FirstDenseSlot && slot < Layout.SlotCount) sum += _weights[place] * numbers[2 + slot - Layout.FirstDenseSlot];
            }
            start += group.RowLength * group.RowsPerSlot * Layout.SlotsPerBlock;
        }
        return sum;
    }

    private void SetWeights()
    {
        double[] logWeights = [.. Enumerable.Range(0, _weights.Length).Select(place => Blend.LogWeightOf(BlendNumbers(place), Layout.KeepsLosses))];
        double greatest = logWeights.Max();
        for (int place = 0; place < _weights.Length; place++) _weights[place] = Elementary.Exp(logWeights[place] - greatest);
        double total = _weights.Sum();
        for (int place = 0; place < _weights.Length; place++) _weights[place] /= total;
    }
}
