package energy

import (
	"cmp"
	"fmt"
	"reflect"
	"strconv"
	"strings"
)

// fieldByKey returns the field of a ledger structure whose JSON key it is.
func fieldByKey(structure reflect.Value, key string) (reflect.Value, bool) {
	for i := range structure.NumField() {
		field := structure.Type().Field(i)
		if field.Anonymous {
			if found, ok := fieldByKey(structure.Field(i), key); ok {
				return found, true
			}
			continue
		}
		if name, _, _ := strings.Cut(field.Tag.Get("json"), ","); name == key {
			return structure.Field(i), true
		}
	}
	return reflect.Value{}, false
}

// numberByKey returns a number of a ledger structure by its key; false where the key
// is none of a number.
func numberByKey(structure any, key string) (Number, bool) {
	field, ok := fieldByKey(reflect.ValueOf(structure), key)
	if !ok {
		return None, false
	}
	switch value := field.Interface().(type) {
	case Number:
		return value, true
	case int64:
		return Number(value), true
	case int:
		return Number(value), true
	}
	return None, false
}

// hotspotKey splits "hotspot.3.density" into the rank 3 and the key.
func hotspotKey(quantity string) (rank int, key string, err error) {
	parts := strings.SplitN(quantity, ".", 3)
	if len(parts) != 3 {
		return 0, "", fmt.Errorf("quantity %q: want hotspot.RANK.KEY", quantity)
	}
	rank, err = strconv.Atoi(parts[1])
	if err != nil || rank < 1 {
		return 0, "", fmt.Errorf("quantity %q: the rank %q is no whole number from 1", quantity, parts[1])
	}
	return rank, parts[2], nil
}

// balanceKey returns the key of a number of the balance: the gap of "balance.gap".
func balanceKey(quantity string) (key string, isOne bool) {
	return strings.CutPrefix(quantity, "balance.")
}

// CheckQuantity returns an error when a requirement's quantity is none that a ledger
// can have: a number of an account by its key, hotspot.RANK.KEY, or balance.KEY.
func CheckQuantity(quantity string) error {
	if key, isOne := balanceKey(quantity); isOne {
		if _, ok := numberByKey(Balance{}, key); !ok {
			return fmt.Errorf("quantity %q: a balance has no number %q", quantity, key)
		}
		return nil
	}
	if strings.HasPrefix(quantity, "hotspot.") {
		_, key, err := hotspotKey(quantity)
		if err != nil {
			return err
		}
		if _, ok := numberByKey(Hotspot{}, key); !ok {
			return fmt.Errorf("quantity %q: a hotspot has no number %q", quantity, key)
		}
		return nil
	}
	if _, ok := numberByKey(Account{}, quantity); !ok {
		return fmt.Errorf("quantity %q: an account has no number of that name", quantity)
	}
	return nil
}

// judge compares each requirement with its number. One whose number is not available
// is not met, and says why.
func judge(ledger *Ledger, requirements []Requirement) []RequirementResult {
	results := []RequirementResult{}
	for i := range requirements {
		r := &requirements[i]
		value, why := valueOf(ledger, r)
		results = append(results, outcome(ledger, r, value, why))
	}
	return results
}

// outcome holds a number of a ledger against a requirement. why says why there is none.
func outcome(ledger *Ledger, r *Requirement, value Number, why string) RequirementResult {
	result := RequirementResult{
		Name: r.Name, Quantity: r.Quantity, Region: Text(r.Region), AtMost: r.AtMost, AtLeast: r.AtLeast,
		Value: value, Met: value.Exists() && !(value > r.AtMost) && !(value < r.AtLeast), Why: Text(why),
	}
	if hidden := cmp.Or(hiddenByYielding(ledger, r), hiddenBySign(r, value)); result.Met && hidden != "" {
		result.Met, result.Why = false, Text(hidden)
	}
	return result
}

// hiddenBySign says why a bound on the balance's gap is not met although its value is
// below: the gap may be of either sign, and at_most bounds its size.
func hiddenBySign(r *Requirement, value Number) string {
	if r.Quantity == "balance.gap" && -value > r.AtMost {
		return "at_most bounds the size of the gap, which may be of either sign"
	}
	return ""
}

// valueOf finds a requirement's number, or says why there is none.
func valueOf(ledger *Ledger, r *Requirement) (Number, string) {
	var structure any = ledger.Total
	key := r.Quantity
	where := "of the whole model"
	if balanced, isOne := balanceKey(r.Quantity); isOne {
		return valueOfBalance(ledger.Balance, balanced)
	}
	if strings.HasPrefix(r.Quantity, "hotspot.") {
		rank, rest, err := hotspotKey(r.Quantity)
		if err != nil {
			return None, err.Error()
		}
		hotspot := hotspotOf(ledger, rank, r.Region)
		if hotspot == nil {
			return None, fmt.Sprintf("there is no hotspot of rank %d", rank)
		}
		structure, key, where = *hotspot, rest, fmt.Sprintf("of hotspot %d", rank)
	} else if r.Region != "" {
		account := regionOf(ledger, r.Region)
		if account == nil {
			return None, fmt.Sprintf("there is no region %q", r.Region)
		}
		structure, where = account.Account, fmt.Sprintf("of region %q", r.Region)
	}
	value, ok := numberByKey(structure, key)
	switch {
	case !ok:
		return None, fmt.Sprintf("%s is no number of an account", r.Quantity)
	case !value.Exists():
		return None, fmt.Sprintf("%s %s is not available", key, where)
	}
	return value, ""
}

// valueOfBalance finds a number of the balance, or says why there is none.
func valueOfBalance(b *Balance, key string) (Number, string) {
	if b == nil {
		return None, "nothing is known of the external work: state [balance] external_work"
	}
	value, ok := numberByKey(*b, key)
	switch {
	case !ok:
		return None, fmt.Sprintf("%s is no number of a balance", key)
	case !value.Exists():
		return None, fmt.Sprintf("%s of the balance is not available: %s", key, strings.Join(b.Reasons, "; "))
	}
	return value, ""
}

// hotspotOf returns the hotspot of a rank, counted within a region where one is named.
func hotspotOf(ledger *Ledger, rank int, region string) *Hotspot {
	for i := range ledger.Hotspots {
		if region != "" && ledger.Hotspots[i].Region != region {
			continue
		}
		if rank--; rank == 0 {
			return &ledger.Hotspots[i]
		}
	}
	return nil
}

// regionOf returns the account of a region by name.
func regionOf(ledger *Ledger, name string) *RegionAccount {
	for i := range ledger.Regions {
		if ledger.Regions[i].Name == name {
			return &ledger.Regions[i]
		}
	}
	return nil
}

// hiddenByYielding says why a requirement on the limit cannot be met while cells have
// yielded: the elastic limit check says nothing of them. A study may accept that.
func hiddenByYielding(ledger *Ledger, r *Requirement) string {
	if !strings.Contains(r.Quantity, "utilisation") && !strings.Contains(r.Quantity, "past_limit") {
		return ""
	}
	yielded := ledger.Total.CellsYielded
	if account := regionOf(ledger, r.Region); account != nil {
		yielded = account.CellsYielded
	}
	if !(yielded > 0) {
		return ""
	}
	for _, finding := range ledger.Findings {
		if finding.Code == "plastic-strain-present" && finding.Accepted != "" {
			return ""
		}
	}
	return fmt.Sprintf("%d cells have plastic strain, so that the limit's utilisation does not describe them", int64(yielded))
}
